/** Largest picture that is taken in, bytes. */
export const mostPictureBytes = 10 * 1024 * 1024;
