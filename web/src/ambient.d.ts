declare module 'bandleaf:notices' {
  /** Third-party notices of everything inside, put in by the build. */
  const notices: string;
  export default notices;
}
