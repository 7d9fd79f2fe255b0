using StreamLogit.Engine.Persistence;

namespace StreamLogit.Pipeline.State;

/// <summary>
/// The archive of a worker's engine: what the engine puts here goes into the state with the next commit, and can be read before that.
/// </summary>
/// <remarks>The engine's task writes, reads and takes; the task that commits says so. Hence the lock, which is taken once a block.</remarks>
public sealed class StateArchive : IBlockArchive, IDisposable
{
    private readonly Lock _lock = new();
    private readonly List<StateBlocks> _taken = []; // on their way to a commit, oldest first
    private readonly BlockReader _committed;
    private StateBlocks _next = new();

    /// <summary>The archive of a state, of which it reads what was committed.</summary>
    internal StateArchive(BlockReader committed) => _committed = committed;

    /// <summary>Hands over what was written since the last call, for the engine to add its changes and for a commit.</summary>
    public StateBlocks Take()
    {
        lock (_lock)
        {
            var taken = _next;
            _taken.Add(taken);
            _next = new StateBlocks();
            return taken;
        }
    }

    /// <summary>Says that what <see cref="Take"/> handed over is in the state now.</summary>
    public void Committed(StateBlocks taken)
    {
        lock (_lock) _taken.Remove(taken);
    }

    /// <summary>Forgets what was written since the last commit, because its engine is given up.</summary>
    public void Rewind()
    {
        lock (_lock)
        {
            _taken.Clear();
            _next = new StateBlocks();
        }
    }

    /// <inheritdoc/>
    public void Write(string part, long number, ReadOnlySpan<byte> bytes) => _next.Put(part, number, bytes);

    /// <inheritdoc/>
    public void Remove(string part, long number) => _next.Remove(part, number);

    /// <inheritdoc/>
    public int Read(string part, long number, ref byte[] target) =>
        TryRead(part, number, ref target, out int length)
            ? length
            : throw new InvalidStateException($"the state has no block {number} of its part '{part}'");

    /// <inheritdoc/>
    public bool TryRead(string part, long number, ref byte[] target, out int length)
    {
        byte[]? bytes = _next.Find(part, number);
        if (bytes is null)
        {
            lock (_lock)
            {
                for (int i = _taken.Count - 1; i >= 0 && bytes is null; i--) bytes = _taken[i].Find(part, number);
            }
        }
        if (bytes is null)
        {
            int? found = _committed.Find(part, number, ref target);
            length = found ?? 0;
            return found is not null;
        }
        length = bytes.Length;
        if (target.Length < length) target = new byte[length];
        bytes.CopyTo(target, 0);
        return true;
    }

    /// <inheritdoc/>
    public IEnumerable<long> Numbers(string part) => _committed.Numbers(part);

    /// <inheritdoc/>
    public void Dispose() => _committed.Dispose();
}
