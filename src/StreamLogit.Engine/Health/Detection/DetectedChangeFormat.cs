namespace StreamLogit.Engine.Health.Detection;

/// <summary>How a change that was found lies in the state.</summary>
internal static class DetectedChangeFormat
{
    public static void Write(BinaryWriter writer, DetectedChange change)
    {
        writer.Write(change.Number);
        writer.Write(change.Detector);
        writer.Write(change.AtMicroseconds);
        writer.Write(change.AtLabel);
        writer.Write(change.SinceMicroseconds);
        writer.Write(change.SinceLabel);
        writer.Write(change.Before);
        writer.Write(change.After);
        writer.Write(change.Sentence);
    }

    public static DetectedChange Read(BinaryReader reader) => new(
        reader.ReadInt64(), reader.ReadString(), reader.ReadInt64(), reader.ReadInt64(), reader.ReadInt64(), reader.ReadInt64(),
        reader.ReadDouble(), reader.ReadDouble(), reader.ReadString());
}
