/** Version of the knowledge: raised by hand with every change of data that can change an answer; the hash tells what is inside. */
export const KNOWLEDGE_VERSION = "2026.12.5";
