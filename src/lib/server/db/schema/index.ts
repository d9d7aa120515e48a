export * from './people';
export * from './limits';
export * from './operators';
export * from './letters';
export * from './trail';
