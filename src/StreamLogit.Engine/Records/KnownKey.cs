using System.Runtime.CompilerServices;
using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>A key of an object, with what is read from its value.</summary>
/// <remarks>
/// Records of one stream mostly have the same keys in the same order. So every key remembers which one came behind it last, and that one
/// is compared first, quotes and all, by one or two loads: no end of string is looked for and nothing is hashed.
/// This memory changes how fast records are read, never what is read.
/// </remarks>
internal sealed unsafe class KnownKey
{
    /// <summary>The longest key, with its quotes, that is compared directly. Shorter than <see cref="RecordBatch.Padding"/>.</summary>
    public const int LongestQuoted = 128;

    /// <summary>Stands where no key is known.</summary>
    public static readonly KnownKey None = CreateUnmatched();

    private readonly byte[] _quoted;
    private readonly ulong _head;
    private readonly ulong _headMask;
    private readonly ulong _tail;
    private readonly int _tailAt;

    /// <summary>A key with the parts that its value gives.</summary>
    public KnownKey(ReadOnlySpan<byte> name, params ReadOnlySpan<RecordPart> parts)
    {
        Name = name.ToArray();
        Parts = parts.ToArray();
        Next = None;
        _quoted = [(byte)'"', .. name, (byte)'"'];
        Span<byte> padded = stackalloc byte[16];
        _quoted.AsSpan(0, Math.Min(_quoted.Length, 8)).CopyTo(padded);
        _head = Unsafe.ReadUnaligned<ulong>(ref padded[0]);
        padded.Clear();
        padded[..Math.Min(_quoted.Length, 8)].Fill(0xFF);
        _headMask = Unsafe.ReadUnaligned<ulong>(ref padded[0]);
        if (_quoted.Length > 8)
        {
            _tailAt = _quoted.Length - 8;
            _tail = Unsafe.ReadUnaligned<ulong>(ref _quoted[_tailAt]);
        }
        else
        {
            _tail = _head;
        }
        bool isPlain = name.IndexOfAnyInRange((byte)0, (byte)0x1F) < 0 && name.IndexOfAny((byte)'"', (byte)'\\') < 0;
        // A first byte of 0xFF stands in no UTF-8.
        if (!isPlain || _quoted.Length > LongestQuoted) _head = _headMask = ulong.MaxValue;
    }

    private KnownKey()
    {
        Name = _quoted = [];
        Parts = [];
        Next = None ?? this;
        _head = ulong.MaxValue;
        _headMask = ulong.MaxValue;
    }

    /// <summary>Its name, unescaped.</summary>
    public byte[] Name { get; }

    /// <summary>What its value is read for, if it is not an object.</summary>
    public RecordPart[] Parts { get; private set; }

    /// <summary>The keys within its value that are read, or null.</summary>
    public KnownObject? Inner { get; set; }

    /// <summary>The key that stands for the same path by another way, or null.</summary>
    public KnownKey? Twin { get; set; }

    /// <summary>The key that came behind it last.</summary>
    public KnownKey Next { get; set; }

    /// <summary>The number of the record in which it was seen last.</summary>
    public long SeenIn { get; set; }

    /// <summary>Whether its value is read.</summary>
    public bool IsRead => Parts.Length > 0 || Inner is not null;

    /// <summary>The length of the name with its quotes.</summary>
    public int QuotedLength => _quoted.Length;

    /// <summary>A key that stands nowhere in a record and matches nothing.</summary>
    public static KnownKey CreateUnmatched() => new();

    /// <summary>Reads its value for one more part.</summary>
    public void Add(RecordPart part) => Parts = [.. Parts, part];

    /// <summary>Whether this key stands here, quotes included, without escapes.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public bool Matches(byte* at)
    {
        if (((Unsafe.ReadUnaligned<ulong>(at) ^ _head) & _headMask) != 0) return false;
        if (_quoted.Length <= 8) return true;
        if (Unsafe.ReadUnaligned<ulong>(at + _tailAt) != _tail) return false;
        return _quoted.Length <= 16 || new ReadOnlySpan<byte>(at, _quoted.Length).SequenceEqual(_quoted);
    }

    /// <inheritdoc/>
    public override string ToString() => Encoding.UTF8.GetString(Name);
}
