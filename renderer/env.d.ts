/// <reference types="vite/client" />
/// <reference types="svelte" />
