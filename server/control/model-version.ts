/** Version of the control model. Raised whenever a figure or verdict may come out otherwise: stored checks of an older one are stale. */
export const MODEL_VERSION = '1'
