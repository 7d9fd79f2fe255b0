using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A scored event as it lies in a segment: a header, its log-odds under every setting, its vector and its id.
/// A view of the segment's bytes, valid until the store changes.
/// </summary>
internal readonly ref struct AwaitingEvent(ReadOnlySpan<byte> bytes, int settings)
{
    private readonly ReadOnlySpan<byte> _bytes = bytes;

    public ref readonly AwaitingHeader Header => ref MemoryMarshal.AsRef<AwaitingHeader>(_bytes);

    /// <summary>The log-odds that each setting gave when the event was scored.</summary>
    public ReadOnlySpan<double> LogOdds =>
        MemoryMarshal.Cast<byte, double>(_bytes.Slice(AwaitingHeader.Size, settings * sizeof(double)));

    /// <summary>The features as they were at scoring.</summary>
    public EncodedVector Vector
    {
        get
        {
            int entries = Header.Entries;
            int values = AwaitingHeader.Size + settings * sizeof(double);
            int slots = values + entries * sizeof(double);
            return new(
                MemoryMarshal.Cast<byte, int>(_bytes.Slice(slots, entries * sizeof(int))),
                MemoryMarshal.Cast<byte, double>(_bytes.Slice(values, entries * sizeof(double))));
        }
    }

    public ReadOnlySpan<byte> Id =>
        _bytes.Slice(AwaitingHeader.Size + settings * sizeof(double) + Header.Entries * (sizeof(double) + sizeof(int)), Header.IdLength);

    /// <summary>The bytes that an event takes, a multiple of 8 so that the next one is aligned.</summary>
    public static int SizeOf(int settings, int entries, int idLength) =>
        (AwaitingHeader.Size + settings * sizeof(double) + entries * (sizeof(double) + sizeof(int)) + idLength + 7) & ~7;

    /// <summary>Lays out an event in <paramref name="target"/>, which has the length that <see cref="SizeOf"/> gives.</summary>
    public static void Write(
        Span<byte> target, in AwaitingHeader header, ReadOnlySpan<double> logOdds, in EncodedVector vector, ReadOnlySpan<byte> id)
    {
        MemoryMarshal.Write(target, header);
        var rest = target[AwaitingHeader.Size..];
        rest = Put(rest, MemoryMarshal.AsBytes(logOdds));
        rest = Put(rest, MemoryMarshal.AsBytes(vector.Values));
        rest = Put(rest, MemoryMarshal.AsBytes(vector.Slots));
        Put(rest, id).Clear();

        static Span<byte> Put(Span<byte> target, ReadOnlySpan<byte> source)
        {
            source.CopyTo(target);
            return target[source.Length..];
        }
    }
}
