/** Version of the measuring core; results keep it. A change that moves any number raises it. */
export const coreVersion = "2.0.0";
