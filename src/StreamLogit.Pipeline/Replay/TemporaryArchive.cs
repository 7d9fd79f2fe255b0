using System.Numerics;
using StreamLogit.Engine;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Pipeline.Replay;

/// <summary>
/// The archive of an engine that keeps no state: a temporary file, made when the first block comes and gone when the archive is.
/// A block has a place whose length is a power of two; places of removed blocks are used again. Small blocks are in a temporary database.
/// </summary>
public sealed class TemporaryArchive : IBlockArchive, IDisposable
{
    private readonly Dictionary<(string Part, long Number), (long Offset, int Length)> _blocks = [];
    private readonly Dictionary<int, Stack<long>> _freePlaces = [];
    private FileStream? _file;
    private TemporarySmallBlocks? _smallBlocks;
    private long _end;

    /// <inheritdoc/>
    public void Write(string part, long number, ReadOnlySpan<byte> bytes)
    {
        if (IsSmall(part))
        {
            (_smallBlocks ??= new TemporarySmallBlocks()).Write(number, bytes);
            return;
        }
        Remove(part, number);
        long offset = PlaceFor(bytes.Length);
        try
        {
            _file ??= new FileStream(
                Path.Combine(Path.GetTempPath(), $"streamlogit-{Guid.NewGuid():N}.tmp"), FileMode.CreateNew, FileAccess.ReadWrite, FileShare.None,
                bufferSize: 0, FileOptions.DeleteOnClose);
            RandomAccess.Write(_file.SafeFileHandle, bytes, offset);
        }
        catch (IOException e)
        {
            throw StorageFault.OfFile(_file?.Name ?? Path.GetTempPath(), e);
        }
        _blocks[(part, number)] = (offset, bytes.Length);
    }

    /// <inheritdoc/>
    public int Read(string part, long number, ref byte[] target) =>
        TryRead(part, number, ref target, out int length) ? length : throw new InvalidStateException($"no block {number} of {part} is archived");

    /// <inheritdoc/>
    public bool TryRead(string part, long number, ref byte[] target, out int length)
    {
        if (IsSmall(part))
        {
            int? found = _smallBlocks?.Find(number, ref target);
            length = found ?? 0;
            return found is not null;
        }
        bool isThere = _blocks.TryGetValue((part, number), out var block);
        length = block.Length;
        if (target.Length < length) target = new byte[length];
        for (int read = 0; read < length;)
        {
            int count = RandomAccess.Read(_file!.SafeFileHandle, target.AsSpan(read, length - read), block.Offset + read);
            if (count == 0) throw new InvalidStateException($"{_file.Name} was cut short");
            read += count;
        }
        return isThere;
    }

    /// <inheritdoc/>
    public void Remove(string part, long number)
    {
        if (IsSmall(part)) throw new NotSupportedException("Small blocks are never removed.");
        if (!_blocks.Remove((part, number), out var block)) return;
        int size = SizeOf(block.Length);
        if (!_freePlaces.TryGetValue(size, out var free)) _freePlaces[size] = free = [];
        free.Push(block.Offset);
    }

    /// <inheritdoc/>
    public IEnumerable<long> Numbers(string part) => _blocks.Keys.Where(k => k.Part == part).Select(k => k.Number).Order();

    /// <inheritdoc/>
    public void Dispose()
    {
        _file?.Dispose();
        _smallBlocks?.Dispose();
    }

    private static bool IsSmall(string part) => part == ScoringEngine.SmallBlocksPart;

    private long PlaceFor(int length)
    {
        int size = SizeOf(length);
        if (_freePlaces.TryGetValue(size, out var free) && free.TryPop(out long offset)) return offset;
        offset = _end;
        _end += size;
        return offset;
    }

    private static int SizeOf(int length) => (int)BitOperations.RoundUpToPowerOf2((uint)Math.Max(length, 1));
}
