using System.Text;
using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Worker.Commands;

/// <summary>The model of a state, which needs no definition beside it: the state keeps its own.</summary>
/// <param name="Stream">The stream that it belongs to.</param>
/// <param name="PublishedSetting">The setting that is published, or null for the blend.</param>
/// <param name="Snapshot">The coefficients and the blend.</param>
/// <param name="Health">How its probabilities did.</param>
/// <param name="Parts">What the state is made of.</param>
internal sealed record SavedModel(string Stream, string? PublishedSetting, ModelSnapshot Snapshot, HealthSnapshot Health, IReadOnlyList<StatePart> Parts)
{
    /// <summary>Reads the last commit of a state.</summary>
    /// <exception cref="WrongInputException">There is no state.</exception>
    public static SavedModel Read(string path)
    {
        string folder = Directory.Exists(path) ? path : Path.GetDirectoryName(Path.GetFullPath(path)) ?? path;
        if (!File.Exists(path) && !Directory.Exists(path)) throw new WrongInputException($"There is no state at {path}.");
        var (info, checkpoint) = Peek(folder);
        var definition = StreamDefinitionReader.Read(Encoding.UTF8.GetBytes(info.Definition), "the definition in the state", folder, use: DefinitionUse.Fit);
        var engine = new ScoringEngine(definition.Engine);
        var health = engine.LoadHealth(checkpoint.Blocks);
        return new SavedModel(info.Stream, definition.Engine.Learning.PublishedSetting, engine.Model(), health, info.Parts);
    }

    // Here the state is the input, so whatever is wrong with it is wrong input.
    private static (StateInfo Info, Checkpoint Checkpoint) Peek(string folder)
    {
        try
        {
            return StateStore.Peek(folder);
        }
        catch (PipelineException exception)
        {
            throw new WrongInputException(exception.Message);
        }
    }

    /// <summary>The coefficients that published scores are made of: those of one setting, or the blend's mean of all settings'.</summary>
    public IEnumerable<NamedCoefficient> PublishedCoefficients()
    {
        var settings = Snapshot.Settings;
        if (PublishedSetting is { } name) return settings.Single(setting => setting.Name == name).Coefficients;
        return settings[0].Coefficients.Select((coefficient, index) => new NamedCoefficient(
            coefficient.Feature, settings.Select((setting, s) => Snapshot.Blend[s].Weight * setting.Coefficients[index].Value).Sum()));
    }
}
