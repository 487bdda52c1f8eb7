// The package brings no types; this is the part of it that write.ts uses.
declare module "write-file-atomic" {
  export default function writeFileAtomic(path: string, data: string | Uint8Array): Promise<void>;
}
