using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// Labels that came with their events and are not known yet, in the order in which they become known. They stay in memory, 24 bytes each; their events
/// lie in the awaiting store.
/// </summary>
internal sealed class ComingLabels
{
    private const string Part = "awaiting/coming";
    private const int BlockLabels = 1024;

    private ComingLabel[] _heap = new ComingLabel[BlockLabels]; // each label is before those at twice its place plus 1 and plus 2
    private bool[] _isDirty = new bool[1]; // of every block of the heap
    private int _savedBlocks;

    public int Count { get; private set; }

    /// <summary>Bytes of memory in use.</summary>
    public long Bytes => (long)_heap.Length * Marshal.SizeOf<ComingLabel>();

    public void Add(in ComingLabel label)
    {
        if (Count == _heap.Length)
        {
            Array.Resize(ref _heap, Count * 2);
            Array.Resize(ref _isDirty, _isDirty.Length * 2);
        }
        int place = Count++;
        for (int parent = (place - 1) / 2; place > 0 && label.IsBefore(_heap[parent]); parent = (place - 1) / 2)
        {
            Put(place, _heap[parent]);
            place = parent;
        }
        Put(place, label);
    }

    /// <summary>Takes the next label that is known at a time.</summary>
    public bool TryTake(long timeMicroseconds, out ComingLabel label)
    {
        label = _heap[0];
        if (Count == 0 || label.KnownAtMicroseconds > timeMicroseconds) return false;
        var last = _heap[--Count];
        int place = 0;
        for (int child = 1; child < Count; child = 2 * place + 1)
        {
            if (child + 1 < Count && _heap[child + 1].IsBefore(_heap[child])) child++;
            if (!_heap[child].IsBefore(last)) break;
            Put(place, _heap[child]);
            place = child;
        }
        Put(place, last);
        return true;
    }

    public void Save(StateBlocks changes)
    {
        int blocks = (Count + BlockLabels - 1) / BlockLabels;
        for (int block = 0; block < blocks; block++)
        {
            if (!_isDirty[block]) continue;
            var labels = _heap.AsSpan(block * BlockLabels, BlockLabels);
            changes.Put(Part, block + 1, MemoryMarshal.AsBytes(labels));
        }
        for (int block = blocks; block < _savedBlocks; block++) changes.Remove(Part, block + 1);
        _isDirty.AsSpan().Clear();
        _savedBlocks = blocks;
        changes.Put(Part, 0, BitConverter.GetBytes(Count));
    }

    public void Load(StateBlocks state)
    {
        Count = BitConverter.ToInt32(state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}"));
        _savedBlocks = (Count + BlockLabels - 1) / BlockLabels;
        int room = 1;
        while (room < _savedBlocks) room *= 2;
        _heap = new ComingLabel[room * BlockLabels];
        _isDirty = new bool[room];
        for (int block = 0; block < _savedBlocks; block++)
        {
            byte[] bytes = state.Find(Part, block + 1) ?? throw new InvalidStateException($"the state has no block {block + 1} of {Part}");
            MemoryMarshal.Cast<byte, ComingLabel>(bytes).CopyTo(_heap.AsSpan(block * BlockLabels));
        }
    }

    private void Put(int place, in ComingLabel label)
    {
        _heap[place] = label;
        _isDirty[place / BlockLabels] = true;
    }
}
