namespace StreamLogit.Pipeline.Definition;

/// <summary>Collects what is wrong with a definition, so that all of it is said together.</summary>
internal sealed class DefinitionErrors
{
    private readonly List<DefinitionError> _errors = [];

    public bool Any => _errors.Count > 0;

    public void Add(DefinitionPlace place, string path, string message) => _errors.Add(new DefinitionError(place, path, message));

    /// <summary>Throws if there is an error: the file's own by line and column, then those of overrides as they were found.</summary>
    /// <exception cref="DefinitionException">There is at least one error.</exception>
    public void ThrowIfAny()
    {
        if (!Any) return;
        throw new DefinitionException(
        [
            .. _errors.OrderBy(error => error.Place.Line == 0).ThenBy(error => error.Place.Line).ThenBy(error => error.Place.Column),
        ]);
    }
}
