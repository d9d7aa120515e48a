/** What the framework gives the plan table; here nothing is sent and nobody leaves. */
export const enhance = () => ({});
export const applyAction = () => Promise.resolve();
export const beforeNavigate = () => undefined;
