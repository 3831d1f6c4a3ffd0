declare module 'bandleaf:notices' {
  /** Third-party notices of everything inside, put in by the build: base64 of raw deflate. */
  const notices: string;
  export default notices;
}
