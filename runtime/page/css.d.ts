// Style sheets are bundled as text.
declare module "*.css" { const text: string; export default text; }
