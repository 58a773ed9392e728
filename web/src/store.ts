// The smallest shared state that serves: a value, its listeners and a hook that redraws on change.
import { useEffect, useState } from 'preact/hooks';

export class Store<T> {
  private value_: T;
  private readonly listeners_ = new Set<(value: T) => void>();
  constructor(value: T) { this.value_ = value; }
  get(): T { return this.value_; }
  set(value: T): void {
    if (Object.is(value, this.value_)) return;
    this.value_ = value;
    for (const listener of [...this.listeners_]) listener(value);
  }
  listen(listener: (value: T) => void): () => void {
    this.listeners_.add(listener);
    return () => { this.listeners_.delete(listener); };
  }
}

export function useStore<T>(store: Store<T>): T {
  const [value, setValue] = useState(store.get());
  useEffect(() => {
    setValue(store.get());  // it may have moved between the first drawing and this effect
    return store.listen(setValue);
  }, [store]);
  return value;
}
