export declare function holdDataDirectory(dataDirectory: string): () => void;
