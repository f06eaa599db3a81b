// The program and version that a file names as its writer. A test holds it to package.json, which a bundle does not carry.

/** As the head of a file has it. */
export const writer = "etamu 0.1.0"
