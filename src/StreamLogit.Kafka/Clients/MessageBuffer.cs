using Confluent.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>Takes the bytes of the message consumed last. As a value, a message is only their number: nothing is allocated for it.</summary>
/// <remarks>The client calls it within each Consume, on the thread that consumes.</remarks>
internal sealed class MessageBuffer : IDeserializer<int>
{
    private byte[] _bytes = new byte[1 << 12];

    /// <summary>The first bytes of the last message.</summary>
    public ReadOnlySpan<byte> Bytes(int length) => _bytes.AsSpan(0, length);

    /// <inheritdoc/>
    public int Deserialize(ReadOnlySpan<byte> data, bool isNull, SerializationContext context)
    {
        if (data.Length > _bytes.Length) _bytes = new byte[Math.Max(data.Length, _bytes.Length * 2)];
        data.CopyTo(_bytes);
        return data.Length;
    }
}
