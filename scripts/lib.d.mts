export declare const root: string;
export declare function buildBackend(): void;
