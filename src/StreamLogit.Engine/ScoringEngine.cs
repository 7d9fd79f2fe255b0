using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine;

/// <summary>
/// The one way in: takes records in their order and gives, for each, a score, a learning step or a reject.
/// Deterministic, without clock, I/O or threads; one thread at a time may use it.
/// </summary>
public sealed class ScoringEngine
{
    /// <summary>An engine that has seen nothing.</summary>
    public ScoringEngine(EngineDefinition definition)
    {
        Definition = definition;
        Schema = new RecordSchema(definition);
    }

    /// <summary>What the engine was made for.</summary>
    public EngineDefinition Definition { get; }

    /// <summary>The fields that it reads; a decoder and batches are made for it.</summary>
    public RecordSchema Schema { get; }

    /// <summary>Whether scores are given their reasons, which costs time and changes nothing else. Default true.</summary>
    public bool GiveReasons { get; set; } = true;

    /// <summary>An empty batch for the scores of this engine.</summary>
    public ScoreBatch CreateScoreBatch() => new(Definition.Decision.Reasons);

    /// <summary>Runs decoded records through the engine and adds to <paramref name="scores"/> what is to be published. Unusable ones become rejects.</summary>
    public void Process(RecordBatch records, ScoreBatch scores) => throw new NotImplementedException();

    /// <summary>How the published probabilities are doing.</summary>
    public HealthSnapshot Health() => throw new NotImplementedException();

    /// <summary>The coefficients with their names.</summary>
    public ModelSnapshot Model() => throw new NotImplementedException();

    /// <summary>Puts what changed since the last call into <paramref name="changes"/>, which the caller keeps with all earlier ones.</summary>
    public void Save(StateBlocks changes) => throw new NotImplementedException();

    /// <summary>Takes up a state that was saved. Only on an engine that has seen nothing.</summary>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another definition.</exception>
    public void Load(StateBlocks state) => throw new NotImplementedException();
}
