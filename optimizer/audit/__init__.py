"""How complete a front is."""
