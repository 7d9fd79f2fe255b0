namespace StreamLogit.Engine.Records;

/// <summary>Reads the UTF-8 JSON of the records of a batch in one pass over their bytes, without allocation.</summary>
/// <remarks>Keeps no state between records, so that it can run on another thread than the engine.</remarks>
public sealed class RecordDecoder(RecordSchema schema)
{
    /// <summary>Decodes every record of the batch that is not a reject yet. What cannot be used becomes a reject with its reason.</summary>
    public void Decode(RecordBatch batch)
    {
        _ = schema;
        throw new NotImplementedException();
    }
}
