/** A system fault in a few words, without a stack. */
export const faultText = (fault: unknown): string => (fault instanceof Error ? fault.message : String(fault));
