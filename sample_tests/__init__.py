"""Sample jobs: invented places, each a readable file with the answers its author worked out."""
