export function Files({ id }: { id: string }) { return <p>{id}</p>; }
