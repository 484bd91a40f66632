import { LoadingWords } from '@/components/ui/states';

export default function Loading() {
  return (
    <main className="page py-10">
      <LoadingWords>Reading the plants’ week.</LoadingWords>
    </main>
  );
}
